using System.CommandLine;
using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Ingest;
using Pipeline.Reduction;

namespace Pipeline.Commands;

/// <summary>arrivals peek: what a file holds, and a layout that fits it.</summary>
static class PeekCommand
{
    const int PlotWidth = 72;

    public static Command Make()
    {
        var path = new Argument<string>("FILE") { Description = "an HDF5 or CSV file, or a folder of CSV files" };
        var save = new Option<string?>("--save") { Description = "write the proposed layout to this file" };
        var command = new Command("peek", "show what is in a file, and propose a layout for it") { path, save };
        command.SetAction(parsed => Peek(parsed.GetRequiredValue(path), parsed.GetValue(save)));
        return command;
    }

    static int Peek(string path, string? save)
    {
        FileSketch sketch = FileSketches.Of(path);
        foreach (string line in sketch.Tree) Console.WriteLine(line);
        Console.WriteLine();
        if (sketch.Proposal is not { } proposal)
        {
            Console.WriteLine("No known layout fits this file; config/layouts/ has one example of each format.");
            return CommandLine.SomeFailed;
        }
        foreach (string role in proposal.Roles) Console.WriteLine($"taken for  {role}");
        Console.WriteLine();
        if (proposal.Question is null) Show(path, proposal.Toml);
        else Console.WriteLine($"The file does not say: {proposal.Question}.");
        Console.WriteLine();
        if (save is null) Console.WriteLine(proposal.Toml);
        else Save(save, proposal.Toml);
        return proposal.Question is null ? 0 : CommandLine.SomeDoNot;
    }

    /// <summary>Reads the file through the proposal, and draws its first shots.</summary>
    static void Show(string path, string toml)
    {
        using IShotSource source = ShotFiles.Open(path, LayoutText.Read(toml, "proposed"), DetectorKind.Counting);
        RecordShape shape = source.Shape;
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"Reads {shape.Shots} shots of {shape.Samples} samples from {1e3 * shape.OriginSeconds:G4} ms in steps of {1e6 * shape.TickSeconds:G4} us with this layout. The first shots, {1e3 * shape.Samples * shape.TickSeconds / PlotWidth:G3} ms a character:"));
        foreach ((ShotInfo info, double[] trace) in First(source, 3)) Console.WriteLine($"  {info.Number,5} {info.Kind,-12} {Sparkline.Of(trace, PlotWidth)}");
    }

    static IEnumerable<(ShotInfo, double[])> First(IShotSource source, int most)
    {
        foreach (ShotBlock block in source.ReadBlocks())
            for (int k = 0; k < block.Shots.Count; k++)
            {
                if (most-- <= 0) yield break;
                yield return (block.Shots[k], [.. Enumerable.Range(k * block.Samples, block.Samples).Select(i => block.Codes is { } codes ? codes[i] : block.Values![i])]);
            }
    }

    static void Save(string path, string toml)
    {
        if (File.Exists(path)) throw new DataFaultException(path, "a file of that name", "a new name", "choose another name for --save, or remove the file");
        File.WriteAllText(path, toml);
        Console.WriteLine($"Layout written to {path}; name it in [[runs]] of night.toml.");
    }
}

/// <summary>A trace in one line of text.</summary>
static class Sparkline
{
    const string Levels = " ▁▂▃▄▅▆▇█";

    public static string Of(double[] trace, int width)
    {
        double[] cells = [.. Enumerable.Range(0, width).Select(c => trace[(int)((long)c * trace.Length / width)..Math.Max((int)((long)(c + 1) * trace.Length / width), (int)((long)c * trace.Length / width) + 1)].Average())];
        double low = Math.Min(0, cells.Min()), high = cells.Max();
        return string.Concat(cells.Select(v => Levels[high > low ? (int)Math.Round((v - low) / (high - low) * (Levels.Length - 1)) : 0]));
    }
}
