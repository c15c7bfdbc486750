using Pipeline.Analysis;
using Pipeline.Configuration;
using Pipeline.Ingest;
using Pipeline.Reports;
using Pipeline.Results;
using Serilog;

namespace Pipeline.Night;

/// <summary>Watches a day while it is recorded: a run is analysed once its files have not changed between two looks.</summary>
/// <param name="lab">Configuration.</param>
/// <param name="path">The day's folder.</param>
/// <param name="results">Folder of the day's results.</param>
/// <param name="log">Where each run is told of.</param>
public sealed class FollowWork(LabConfiguration lab, string path, string results, ILogger log)
{
    readonly Dictionary<string, Stamp> _seen = new(StringComparer.Ordinal), _analysed = new(StringComparer.Ordinal);
    readonly SortedDictionary<string, RunOutcome> _done = new(StringComparer.Ordinal);
    readonly SortedDictionary<string, FailedRun> _failed = new(StringComparer.Ordinal);

    /// <summary>Size and last change of all files of a run.</summary>
    readonly record struct Stamp(long Bytes, DateTime Changed, int Files);

    /// <summary>One look at the folder.</summary>
    /// <returns>The day so far if a run was analysed, else null; and whether anything is still changing.</returns>
    public (NightOutcome? News, bool Waiting) Look()
    {
        DayFolder day = DayFolder.Open(path, lab);
        (bool news, bool waiting) = (false, false);
        foreach (RunFile run in day.Runs)
        {
            Stamp now = StampOf(run);
            bool stable = _seen.TryGetValue(run.Name, out Stamp before) && before == now;
            _seen[run.Name] = now;
            if (_analysed.TryGetValue(run.Name, out Stamp done) && done == now) continue;
            if (stable)
            {
                Analyse(day, run);
                _analysed[run.Name] = now;
                news = true;
            }
            else waiting = true;
        }
        if (!news) return (null, waiting);
        var outcome = new NightOutcome(day.Name, [.. _done.Values], [.. _failed.Values], day.NotRuns);
        RunResults.Write(results, outcome);
        return (outcome, waiting);
    }

    void Analyse(DayFolder day, RunFile run)
    {
        _done.Remove(run.Name);
        _failed.Remove(run.Name);
        try
        {
            _done[run.Name] = NightWork.Analyse(lab, day, run, results);
            log.Information("{Run}: {Judgement}", run.Name, Words.Of(_done[run.Name].Verdict.Judgement));
        }
        catch (DataFaultException e)
        {
            _failed[run.Name] = new FailedRun(run.Name, e.Fault);
            RunResults.RemoveStale(Path.Combine(results, run.Name));
            log.Warning("{Run}: not analysed yet. {Fault}", run.Name, e.Fault.ToString());
        }
    }

    static Stamp StampOf(RunFile run)
    {
        var files = new List<FileInfo>();
        if (Directory.Exists(run.Path)) files.AddRange(FolderList.Of(run.Path).Select(f => new FileInfo(f)));
        else files.Add(new FileInfo(run.Path));
        if (run.ShotTablePath is { } table) files.Add(new FileInfo(table));
        FileInfo[] there = [.. files.Where(f => f.Exists)];
        return new Stamp(there.Sum(f => f.Length), there.Select(f => f.LastWriteTimeUtc).DefaultIfEmpty().Max(), there.Length);
    }
}
