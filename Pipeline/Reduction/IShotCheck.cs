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
    public static IReadOnlyList<IShotCheck> For(ReductionSettings settings, RecordShape shape)
    {
        var checks = new List<IShotCheck>();
        if (settings.CutFlatRecords) checks.Add(new MissingTrigger());
        if (settings.UnlockedBeyondHz is { } limit) checks.Add(new UnlockedProbe(limit));
        if (settings.CutSaturated && (shape.LowestCode is not null || shape.HighestCode is not null))
            checks.Add(new Saturated(shape.LowestCode ?? int.MinValue, shape.HighestCode ?? int.MaxValue));
        return checks;
    }
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

/// <summary>Samples at or beyond the range of the digitiser.</summary>
sealed class Saturated(int lowest, int highest) : IShotCheck
{
    public string Reason => "saturated";
    public bool Cuts(in ShotView shot) => shot.Lowest <= lowest || shot.Highest >= highest;
}
