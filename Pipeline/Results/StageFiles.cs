using System.Text.Json;
using System.Text.Json.Serialization;
using Pipeline.Fitting;

namespace Pipeline.Results;

/// <summary>What a stage wrote, with the fingerprint of all it was made from.</summary>
/// <param name="Fingerprint">Hash of inputs, configuration and program.</param>
/// <param name="Fits">The result.</param>
sealed record FitStage(string Fingerprint, IReadOnlyList<SpectrumOutcome> Fits);

/// <summary>Files that one stage leaves for the next; a stage whose fingerprint does not match is done again.</summary>
static class StageFiles
{
    const string FitName = "fit.json";

    static readonly JsonSerializerOptions Options = new() { NumberHandling = JsonNumberHandling.AllowNamedFloatingPointLiterals };

    /// <summary>The fits of this fingerprint, or null where there are none.</summary>
    public static IReadOnlyList<SpectrumOutcome>? ReadFits(string folder, string fingerprint)
    {
        string path = Path.Combine(folder, FitName);
        if (!File.Exists(path)) return null;
        try
        {
            FitStage? stage = JsonSerializer.Deserialize<FitStage>(File.ReadAllBytes(path), Options);
            return stage?.Fingerprint == fingerprint ? stage.Fits : null;
        }
        catch (JsonException)
        {
            return null; // written by another version: done again
        }
    }

    public static void WriteFits(string folder, string fingerprint, IReadOnlyList<SpectrumOutcome> fits) =>
        Atomically.Write(Path.Combine(folder, FitName), JsonSerializer.SerializeToUtf8Bytes(new FitStage(fingerprint, fits), Options));
}

/// <summary>Files that are either the old or the new one, never half of it.</summary>
static class Atomically
{
    /// <exception cref="DataFaultException">Disk full, no permission, or another fault of the file system.</exception>
    public static void Write(string path, byte[] content)
    {
        string aside = path + ".part";
        try
        {
            MakeFolder(Path.GetDirectoryName(path)!);
            File.WriteAllBytes(aside, content);
            File.Move(aside, path, overwrite: true);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(Path.GetFileName(path), $"a result that cannot be written ({e.Message})", "a folder with space and permission to write",
                "free space, or name another folder with --results");
        }
    }

    /// <summary>A folder for results.</summary>
    /// <exception cref="DataFaultException">It cannot be made.</exception>
    public static void MakeFolder(string path)
    {
        try { Directory.CreateDirectory(path); }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(path, $"a folder that cannot be made ({e.Message})", "a place with permission to write", "name another folder with --results");
        }
    }

    public static void Write(string path, string text) => Write(path, System.Text.Encoding.UTF8.GetBytes(text));
}
