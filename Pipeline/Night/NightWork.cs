using Pipeline.Analysis;
using Pipeline.Configuration;
using Pipeline.Reports;
using Pipeline.Results;
using Serilog;

namespace Pipeline.Night;

/// <summary>All runs of a day; a run that fails never stops the others.</summary>
public static class NightWork
{
    /// <param name="lab">Configuration.</param>
    /// <param name="day">The day's folder.</param>
    /// <param name="results">Folder of the day's results.</param>
    /// <param name="log">Where each run is told of.</param>
    public static NightOutcome Run(LabConfiguration lab, DayFolder day, string results, ILogger log)
    {
        var done = new RunOutcome?[day.Runs.Count];
        var failed = new FailedRun?[day.Runs.Count];
        Parallel.For(0, day.Runs.Count, new ParallelOptions { MaxDegreeOfParallelism = Environment.ProcessorCount }, k =>
        {
            RunFile run = day.Runs[k];
            try
            {
                done[k] = Analyse(lab, day, run, results);
                log.Information("{Run}: {Judgement}", run.Name, Words.Of(done[k]!.Verdict.Judgement));
            }
            catch (DataFaultException e)
            {
                Fail(k, e.Fault, null);
            }
            catch (Exception e)
            {
                // a defect of the program in one run must not cost the night the others
                Fail(k, new Fault(run.Name, $"a defect of the program ({e.GetType().Name}: {e.Message})", "an analysis or a fault in the data",
                    "please report it, with night.log.jsonl"), e);
            }
        });
        void Fail(int k, Fault fault, Exception? defect)
        {
            failed[k] = new FailedRun(day.Runs[k].Name, fault);
            RunResults.RemoveStale(Path.Combine(results, day.Runs[k].Name));
            log.Error(defect, "{Run}: not analysed. {Fault}", day.Runs[k].Name, fault.ToString());
        }
        var joints = new List<RunOutcome>();
        var jointFailures = new List<FailedRun>();
        foreach (JointRule rule in lab.Joints)
        {
            try
            {
                if (JointWork.Analyse(lab, day, rule, results) is { } joint) joints.Add(joint);
                else log.Information("{Joint}: fewer than two runs of this day belong to it", rule.Name);
            }
            catch (DataFaultException e)
            {
                jointFailures.Add(new FailedRun(rule.Name, e.Fault));
                RunResults.RemoveStale(Path.Combine(results, rule.Name));
                log.Error("{Joint}: not analysed. {Fault}", rule.Name, e.Fault.ToString());
            }
        }
        var night = new NightOutcome(day.Name, [.. done.OfType<RunOutcome>()], [.. failed.OfType<FailedRun>(), .. jointFailures], day.NotRuns) { Joints = joints };
        RunResults.Write(results, night);
        return night;
    }

    /// <summary>All stages of one run.</summary>
    internal static RunOutcome Analyse(LabConfiguration lab, DayFolder day, RunFile file, string results)
    {
        var work = new RunWork(lab, day, file, results);
        Reduction.BinnedRun run = work.Ingest(out _);
        return work.Compare(run, work.Fit(run, out _));
    }
}
