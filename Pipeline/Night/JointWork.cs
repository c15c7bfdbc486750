using System.IO.Enumeration;
using System.Security.Cryptography;
using System.Text;
using Pipeline.Analysis;
using Pipeline.Comparison;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Results;

namespace Pipeline.Night;

/// <summary>What a run was made from.</summary>
/// <param name="Fingerprint">Of input, configuration and program.</param>
/// <param name="Inputs">Its files.</param>
/// <param name="Reader">Which library read them.</param>
sealed record RunPart(string Fingerprint, IReadOnlyList<InputFile> Inputs, string Reader);

/// <summary>Runs of a day that share a beam, fitted together; a fit is reused as those of single runs are.</summary>
static class JointWork
{
    /// <param name="lab">Configuration.</param>
    /// <param name="day">The day.</param>
    /// <param name="rule">Which runs.</param>
    /// <param name="results">Folder of the day's results.</param>
    /// <returns>Null where the day has fewer than two such runs.</returns>
    public static RunOutcome? Analyse(LabConfiguration lab, DayFolder day, JointRule rule, string results)
    {
        RunFile[] runs = [.. rule.Runs.SelectMany(p => day.Runs.Where(r => FileSystemName.MatchesSimpleExpression(p, r.Name, ignoreCase: false))).Distinct()];
        if (runs.Length < 2) return null;
        (JointMember Member, RunPart Part)[] parts = [.. runs.Select(r => new RunWork(lab, day, r, results).ForJoint(rule.Condition))];
        string folder = Path.Combine(results, rule.Name), all = string.Join('\n', parts.Select(p => p.Part.Fingerprint)) + $"\n{rule}";
        string fingerprint = Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(all)));
        IReadOnlyList<SpectrumOutcome>? fits = StageFiles.ReadFits(folder, fingerprint);
        if (fits is null)
        {
            fits = RunAnalysis.FitTogether([.. parts.Select(p => p.Member)], lab.Analysis, rule.YieldMayDiffer);
            StageFiles.WriteFits(folder, fingerprint, fits);
        }
        ShotTally[] tallies = [.. parts.Select(p => ShotTally.Of(p.Member.Run))];
        var outcome = new RunOutcome
        {
            Name = rule.Name, Mode = RunAnalysis.Joint,
            Tally = new ShotTally(tallies.Sum(t => t.Read), [.. tallies.SelectMany(t => t.Cuts)], [.. tallies.SelectMany(t => t.Kept).Where(k => k.Condition == rule.Condition)]),
            Conditions = [.. fits.Select(f => new ConditionOutcome(f, null, false))],
            Verdict = new Verdict(Judgement.Undecided, ["joint fits are compared with nothing; see the runs"], []),
            Remarks = [.. fits.SelectMany(f => f.Remarks).Distinct(StringComparer.Ordinal)],
            Provenance = new Provenance
            {
                Inputs = [.. parts.SelectMany(p => p.Part.Inputs).Distinct()], Predictions = [], Configuration = lab.Digest, Program = ProgramVersion.Text,
                NumericalVersion = RunAnalysis.NumericalVersion, Seed = lab.Analysis.Fit.Seed, Reader = parts[0].Part.Reader,
            },
        };
        RunResults.Write(folder, outcome);
        return outcome;
    }
}
