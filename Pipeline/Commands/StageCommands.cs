using System.CommandLine;
using Pipeline.Analysis;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Night;
using Pipeline.Reduction;

namespace Pipeline.Commands;

/// <summary>arrivals ingest, fit and compare: one stage of one run, on top of what earlier stages left.</summary>
static class StageCommands
{
    public static Command Ingest() => Make("ingest", "read and check the shots of a run and sum them", (work, _) =>
    {
        BinnedRun run = work.Ingest(out bool reused);
        Lines.Shots(run, reused);
        return 0;
    });

    public static Command Fit() => Make("fit", "velocity spectra and molecule numbers of a run", (work, _) =>
    {
        BinnedRun run = work.Ingest(out bool before);
        Lines.Shots(run, before);
        foreach (SpectrumOutcome fit in work.Fit(run, out bool reused)) Lines.Fitted(fit, reused);
        return 0;
    });

    public static Command Compare() => Make("compare", "compare a run with its prediction, and write all its results", (work, _) =>
    {
        BinnedRun run = work.Ingest(out bool before);
        Lines.Shots(run, before);
        IReadOnlyList<SpectrumOutcome> fits = work.Fit(run, out bool reused);
        foreach (SpectrumOutcome fit in fits) Lines.Fitted(fit, reused);
        RunOutcome outcome = work.Compare(run, fits);
        Lines.Verdict(outcome);
        return outcome.Verdict.Judgement == Comparison.Judgement.Agrees ? CommandLine.AllAgree : CommandLine.SomeDoNot;
    });

    static Command Make(string name, string description, Func<RunWork, ParseResult, int> act)
    {
        var folders = new Folders();
        var run = new Argument<string>("RUN") { Description = "name of the run: its file name, with or without extension" };
        var command = new Command(name, description);
        folders.AddTo(command);
        command.Add(run);
        command.SetAction(parsed =>
        {
            string dayPath = parsed.GetRequiredValue(folders.Day);
            LabConfiguration lab = ConfigurationReader.Read(Folders.FindConfig(parsed.GetValue(folders.Config), dayPath));
            DayFolder day = DayFolder.Open(dayPath, lab);
            RunFile file = day.Find(parsed.GetRequiredValue(run));
            try
            {
                return act(new RunWork(lab, day, file, Path.Combine(parsed.GetRequiredValue(folders.Results), day.Name)), parsed);
            }
            catch (DataFaultException e)
            {
                Console.Error.WriteLine($"{file.Name}: not analysed. {e.Fault}");
                return CommandLine.SomeFailed;
            }
        });
        return command;
    }
}
