using System.CommandLine;
using System.Globalization;
using Pipeline.Analysis;
using Pipeline.Comparison;
using Pipeline.Configuration;
using Pipeline.Night;
using Pipeline.Results;
using Serilog;
using Serilog.Core;
using Serilog.Events;
using Serilog.Formatting.Compact;

namespace Pipeline.Commands;

/// <summary>arrivals night: every run of a day.</summary>
static class NightCommand
{
    public static Command Make()
    {
        var folders = new Folders();
        var command = new Command("night", "analyse every run of a day, and write one page for the morning");
        folders.AddTo(command);
        command.SetAction(parsed =>
        {
            string dayPath = parsed.GetRequiredValue(folders.Day);
            LabConfiguration lab = ConfigurationReader.Read(Folders.FindConfig(parsed.GetValue(folders.Config), dayPath));
            DayFolder day = DayFolder.Open(dayPath, lab);
            if (day.Runs.Count == 0)
                throw new DataFaultException(dayPath, $"no file that a [[runs]] rule matches ({string.Join(", ", lab.Runs.Select(r => r.Match))})", "at least one run",
                    "name the right folder, or correct the rules in night.toml");
            string results = Path.Combine(parsed.GetRequiredValue(folders.Results), day.Name);
            Atomically.MakeFolder(results);
            using Logger log = OpenLog(Path.Combine(results, "night.log.jsonl"));
            NightOutcome night = NightWork.Run(lab, day, results, log);
            Summary(night, results);
            return ExitCode(night);
        });
        return command;
    }

    /// <summary>Readable on the console, one JSON object a line in the file.</summary>
    internal static Logger OpenLog(string path)
    {
        File.Delete(path);
        return new LoggerConfiguration()
            .WriteTo.Console(outputTemplate: "{Timestamp:HH:mm:ss} {Message:lj}{NewLine}", formatProvider: CultureInfo.InvariantCulture,
                standardErrorFromLevel: LogEventLevel.Error, theme: Serilog.Sinks.SystemConsole.Themes.ConsoleTheme.None)
            .WriteTo.File(new CompactJsonFormatter(), path)
            .CreateLogger();
    }

    internal static void Summary(NightOutcome night, string results)
    {
        Console.WriteLine();
        Console.WriteLine(Lines.Head);
        foreach (RunOutcome run in night.Runs) Lines.Row(run);
        foreach (RunOutcome joint in night.Joints) Lines.Joint(joint);
        foreach (FailedRun failed in night.Failed) Console.WriteLine($"  {failed.Name,-18} not analysed. {failed.Fault}");
        if (night.NotRuns.Count > 0) Console.WriteLine($"  no runs by the rules of night.toml: {string.Join(", ", night.NotRuns)}");
        int Count(Judgement j) => night.Runs.Count(r => r.Verdict.Judgement == j);
        Console.WriteLine();
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"{night.Day}: {Count(Judgement.Agrees)} agree, {Count(Judgement.Disagrees)} disagree, {Count(Judgement.Undecided)} undecided, {night.Failed.Count} not analysed. Page: {Path.Combine(results, "night.html")}"));
    }

    internal static int ExitCode(NightOutcome night) => night.Failed.Count > 0 ? CommandLine.SomeFailed
        : night.Runs.All(r => r.Verdict.Judgement == Judgement.Agrees) ? CommandLine.AllAgree : CommandLine.SomeDoNot;
}
