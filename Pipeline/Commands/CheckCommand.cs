using System.CommandLine;
using System.Globalization;
using Pipeline.Configuration;

namespace Pipeline.Commands;

/// <summary>arrivals check: validates the configuration without running anything.</summary>
static class CheckCommand
{
    public static Command Make()
    {
        var config = new Option<string?>("--config") { Description = "configuration folder; left out: the nearest folder named config" };
        var command = new Command("check", "validate the configuration, and say what is wrong with it") { config };
        command.SetAction(parsed =>
        {
            string folder = Folders.FindConfig(parsed.GetValue(config), ".");
            IReadOnlyList<Fault> faults = ConfigurationReader.Check(folder);
            foreach (Fault fault in faults) Console.Error.WriteLine(fault);
            if (faults.Count > 0) return CommandLine.Usage;
            LabConfiguration lab = ConfigurationReader.Read(folder);
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"{lab.Files.Count} files are valid: {lab.Setup.Species.Name}, {lab.Setup.Conditions.Count} conditions, {lab.Runs.Count} rules for runs, {lab.Predictions.Count} predictions"));
            return 0;
        });
        return command;
    }
}
