using System.CommandLine;
using Pipeline.Analysis;
using Pipeline.Configuration;
using Pipeline.Night;
using Pipeline.Results;
using Serilog.Core;

namespace Pipeline.Commands;

/// <summary>arrivals follow: analyses runs while the day is recorded.</summary>
static class FollowCommand
{
    public static Command Make()
    {
        var folders = new Folders();
        var every = new Option<double>("--every") { Description = "seconds between two looks at the folder", DefaultValueFactory = _ => 5 };
        var idle = new Option<double?>("--until-idle") { Description = "stop when nothing has changed for so many seconds; left out: until it is interrupted" };
        every.Validators.Add(r => { if (r.Tokens.Count == 1 && double.TryParse(r.Tokens[0].Value, System.Globalization.CultureInfo.InvariantCulture, out double s) && !(s >= 0.05)) r.AddError("--every takes 0.05 seconds or more"); });
        var command = new Command("follow", "watch a folder during the day: analyse each run as soon as its files are complete and stable");
        folders.AddTo(command);
        command.Add(every);
        command.Add(idle);
        command.SetAction(async (parsed, stop) =>
        {
            string day = parsed.GetRequiredValue(folders.Day);
            LabConfiguration lab = ConfigurationReader.Read(Folders.FindConfig(parsed.GetValue(folders.Config), day));
            string results = Path.Combine(parsed.GetRequiredValue(folders.Results), DayFolder.Open(day, lab).Name);
            Atomically.MakeFolder(results);
            using Logger log = NightCommand.OpenLog(Path.Combine(results, "follow.log.jsonl"));
            return await Follow(new FollowWork(lab, day, results, log), results, parsed.GetValue(every), parsed.GetValue(idle), stop).ConfigureAwait(false);
        });
        return command;
    }

    static async Task<int> Follow(FollowWork work, string results, double every, double? untilIdle, CancellationToken stop)
    {
        NightOutcome? last = null;
        for (double idle = 0; !stop.IsCancellationRequested;)
        {
            (NightOutcome? news, bool waiting) = work.Look();
            if (news is not null) NightCommand.Summary(last = news, results);
            idle = news is null && !waiting ? idle + every : 0;
            if (idle >= untilIdle) break;
            try { await Task.Delay(TimeSpan.FromSeconds(every), stop).ConfigureAwait(false); }
            catch (OperationCanceledException) { break; }
        }
        return last is null ? 0 : NightCommand.ExitCode(last);
    }
}
