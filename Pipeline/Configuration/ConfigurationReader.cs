using System.Security.Cryptography;
using System.Text;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Ingest;

namespace Pipeline.Configuration;

/// <summary>Reads and validates a configuration folder.</summary>
public static class ConfigurationReader
{
    const string Apparatus = "apparatus.toml", Night = "night.toml";

    /// <exception cref="DataFaultException">The first fault that is found.</exception>
    public static LabConfiguration Read(string folder)
    {
        var faults = new List<Fault>();
        LabConfiguration? read = Read(folder, faults);
        return read ?? throw new DataFaultException(faults[0]);
    }

    /// <summary>Every file's first fault; empty where all is well.</summary>
    public static IReadOnlyList<Fault> Check(string folder)
    {
        var faults = new List<Fault>();
        Read(folder, faults);
        return faults;
    }

    static LabConfiguration? Read(string folder, List<Fault> faults)
    {
        if (!Directory.Exists(folder))
        {
            faults.Add(new Fault(Path.GetFileName(Path.TrimEndingDirectorySeparator(folder)), "no such folder", "a configuration folder", "name it with --config"));
            return null;
        }
        var files = new SortedSet<string>(StringComparer.Ordinal) { Apparatus, Night };
        var (shots, molecules, broken) = ReadLayouts(folder, files, faults);
        var apparatus = Try(faults, () => Tuple.Create(ApparatusReader.Read(TomlFile.Read(folder, Apparatus), (root, name) => SpeciesOf(folder, root, name, files), (table, key) => FileOf(folder, table, key, files))));
        Apparatus.Setup? setup = apparatus?.Item1.Setup;
        var choices = new NightChoices([.. BackgroundModels.All.Select(b => b.Name)], SpectrumEstimatorNames.All, [.. Analysis.RunAnalysis.Modes],
            [.. shots.Keys, .. broken], [.. molecules.Keys, .. broken], setup?.Conditions.Keys.ToArray() ?? [], apparatus?.Item1.Detectors.Keys.ToArray() ?? [], apparatus?.Item1.Probes.Keys.ToArray() ?? []);
        if (setup is null) return null;
        var night = Try(faults, () => Tuple.Create(NightReader.Read(TomlFile.Read(folder, Night), choices)));
        if (night is null || faults.Count > 0) return null;
        return new LabConfiguration
        {
            Setup = setup, Detectors = apparatus!.Item1.Detectors, Probes = apparatus.Item1.Probes, Analysis = night.Item1.Settings, Runs = night.Item1.Runs, Predictions = night.Item1.Predictions, Joints = night.Item1.Joints, ShotLayouts = shots,
            MoleculeLayouts = molecules, Files = [.. files], Digest = DigestOf(folder, files),
        };
    }

    /// <summary>Layouts by name, and the names of those with a fault: a rule that names one of these is not at fault itself.</summary>
    static (Dictionary<string, ShotFileLayout>, Dictionary<string, MoleculeFileLayout>, List<string> Broken) ReadLayouts(string folder, SortedSet<string> files, List<Fault> faults)
    {
        var shots = new Dictionary<string, ShotFileLayout>(StringComparer.Ordinal);
        var molecules = new Dictionary<string, MoleculeFileLayout>(StringComparer.Ordinal);
        string below = Path.Combine(folder, "layouts");
        var broken = new List<string>();
        if (!Directory.Exists(below)) return (shots, molecules, broken);
        foreach (string path in FolderList.Of(below, "*.toml"))
        {
            string relative = $"layouts/{Path.GetFileName(path)}", name = Path.GetFileNameWithoutExtension(path);
            files.Add(relative);
            object? layout = Try(faults, () => LayoutReader.Read(TomlFile.Read(folder, relative), name));
            if (layout is ShotFileLayout shot) shots[name] = shot;
            else if (layout is MoleculeFileLayout list) molecules[name] = list;
            else broken.Add(name);
        }
        return (shots, molecules, broken);
    }

    static Apparatus.Species SpeciesOf(string folder, TomlTable root, string name, SortedSet<string> files)
    {
        string relative = $"species/{name}.toml", below = Path.Combine(folder, "species");
        string[] known = Directory.Exists(below) ? [.. FolderList.Of(below, "*.toml").Select(p => Path.GetFileNameWithoutExtension(p)!)] : [];
        if (!known.Contains(name, StringComparer.Ordinal))
            throw root.Refuse("species", $"\"{name}\"", "a file of that name in species/", known.Length > 0 ? NearestName.Remedy(name, known) : "write one");
        files.Add(relative);
        return SpeciesReader.Read(TomlFile.Read(folder, relative));
    }

    /// <summary>Path of a data file in the configuration folder, which then belongs to the configuration.</summary>
    static string FileOf(string folder, TomlTable table, string key, SortedSet<string> files)
    {
        string name = table.Text(key), path = Path.Combine(folder, name);
        if (name.Length == 0 || Path.IsPathRooted(name) || name.Split('/', '\\').Contains(".."))
            throw table.Refuse(key, $"\"{name}\"", "a path below the configuration folder", "copy the file there");
        if (!File.Exists(path)) throw table.Refuse(key, $"\"{name}\", which is not there", "a file in the configuration folder", "copy it there, or correct the name");
        files.Add(name.Replace('\\', '/'));
        return path;
    }

    static T? Try<T>(List<Fault> faults, Func<T> read) where T : class
    {
        try { return read(); }
        catch (DataFaultException e)
        {
            faults.Add(e.Fault);
            return null;
        }
    }

    static string DigestOf(string folder, IEnumerable<string> files)
    {
        using var hash = IncrementalHash.CreateHash(HashAlgorithmName.SHA256);
        foreach (string file in files)
        {
            byte[] content = File.ReadAllBytes(Path.Combine(folder, file));
            hash.AppendData(Encoding.UTF8.GetBytes($"{file}\0{content.Length}\0"));
            hash.AppendData(content);
        }
        return Convert.ToHexStringLower(hash.GetHashAndReset());
    }
}
