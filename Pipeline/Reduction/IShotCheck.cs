namespace Pipeline.Reduction;

/// <summary>What a check may look at: housekeeping and the limits of the recording, never the size of the signal.</summary>
/// <param name="Info">Housekeeping.</param>
/// <param name="Lowest">Lowest sample of the shot.</param>
/// <param name="Highest">Highest sample of the shot.</param>
/// <param name="MedianDetuning">Of all shots with a readback, Hz; NaN where there is none.</param>
public readonly record struct ShotView(ShotInfo Info, double Lowest, double Highest, double MedianDetuning);

/// <summary>A reason to leave a shot out.</summary>
public interface IShotCheck
{
    /// <summary>As it stands in results and reports.</summary>
    string Reason { get; }

    bool Cuts(in ShotView shot);
}

/// <summary>The checks that settings ask for, in the order in which a shot is blamed.</summary>
public static class ShotChecks
{
    public static IReadOnlyList<IShotCheck> For(ReductionSettings settings, RecordShape shape, IReadOnlyList<ShotInfo> allShots)
    {
        var checks = new List<IShotCheck> { new RepeatedShot() };
        if (settings.CutFlatRecords) checks.Add(new MissingTrigger());
        if (settings.UnlockedBeyondHz is { } limit) checks.Add(new UnlockedProbe(limit));
        if (settings.MonitorOutlierBeyond is { } deviations) checks.Add(new MonitorOutlier(deviations, allShots));
        if (settings.CutSaturated && (shape.LowestCode is not null || shape.HighestCode is not null))
            checks.Add(new Saturated(shape.LowestCode ?? int.MinValue, shape.HighestCode ?? int.MaxValue));
        return checks;
    }
}

/// <summary>An earlier shot of the file has the same number: written twice, as after a restart of the acquisition.</summary>
sealed class RepeatedShot : IShotCheck
{
    public string Reason => "repeated shot";
    public bool Cuts(in ShotView shot) => shot.Info.Repeated;
}

/// <summary>The record is one constant value: the digitiser never ran.</summary>
sealed class MissingTrigger : IShotCheck
{
    public string Reason => "missing trigger";
    public bool Cuts(in ShotView shot) => shot.Lowest == shot.Highest;
}

/// <summary>The laser reads back far from where the run was taken.</summary>
sealed class UnlockedProbe(double limitHz) : IShotCheck
{
    public string Reason => "probe unlocked";
    public bool Cuts(in ShotView shot) => Math.Abs(shot.Info.DetuningReadback - shot.MedianDetuning) > limitHz;
}

/// <summary>A probe monitor far from that of the other shots of its kind.</summary>
/// <remarks>Median and median absolute deviation times 1.4826, which is the standard deviation of normal noise (Rousseeuw and Croux, J. Am.
/// Stat. Assoc. 88, 1273, 1993). The ablation monitor is left alone: it follows the yield, and cutting on it would cut on the signal.</remarks>
sealed class MonitorOutlier : IShotCheck
{
    readonly double _beyond;
    readonly Dictionary<(string, ShotKind), (double Median, double Deviation)> _usual;

    public MonitorOutlier(double beyond, IReadOnlyList<ShotInfo> shots)
    {
        _beyond = beyond;
        _usual = shots.Where(s => double.IsFinite(s.ProbeMonitor)).GroupBy(s => (s.Condition, s.Kind)).ToDictionary(g => g.Key, g =>
        {
            double median = Median([.. g.Select(s => s.ProbeMonitor)]);
            return (median, 1.4826 * Median([.. g.Select(s => Math.Abs(s.ProbeMonitor - median))]));
        });
    }

    public string Reason => "monitor outlier";

    public bool Cuts(in ShotView shot) => _usual.TryGetValue((shot.Info.Condition, shot.Info.Kind), out var usual)
        && usual.Deviation > 0 && Math.Abs(shot.Info.ProbeMonitor - usual.Median) > _beyond * usual.Deviation;

    static double Median(double[] values)
    {
        Array.Sort(values);
        int half = values.Length / 2;
        return values.Length % 2 == 1 ? values[half] : 0.5 * (values[half - 1] + values[half]);
    }
}

/// <summary>Samples at or beyond the range of the digitiser.</summary>
sealed class Saturated(int lowest, int highest) : IShotCheck
{
    public string Reason => "saturated";
    public bool Cuts(in ShotView shot) => shot.Lowest <= lowest || shot.Highest >= highest;
}
