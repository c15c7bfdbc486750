namespace Pipeline.Reduction;

/// <summary>How shots are checked and binned.</summary>
public sealed record ReductionSettings
{
    /// <summary>Shots of one condition and kind that are summed together; the unit of resampling.</summary>
    public int ShotsPerBlock { get; init; } = 1;
    /// <summary>Bin width as a share of the time after the trigger.</summary>
    public double RelativeBinWidth { get; init; } = 0.01;
    /// <summary>Signal shots are summed by the points of a scan.</summary>
    public bool ByPoint { get; init; }
    /// <summary>Shots whose laser reads within this of each other are one point, Hz; null: the file numbers its points.</summary>
    public double? ScanStepHz { get; init; }
    /// <summary>No bin is narrower, s.</summary>
    public double ShortestBinSeconds { get; init; } = 20e-6;
    /// <summary>A shot whose laser reads more than this from the run's median is cut, Hz; null: not checked.</summary>
    public double? UnlockedBeyondHz { get; init; }
    /// <summary>A shot whose monitor is further than this many scaled median deviations from the median of its kind is cut; null: not
    /// checked.</summary>
    public double? MonitorOutlierBeyond { get; init; }
    /// <summary>Analog: cut shots without a mark (pick-up or flash) of more than five times their noise in this time after the trigger, s;
    /// null: not checked.</summary>
    public double? TriggerMarkWithinSeconds { get; init; }
    /// <summary>Cut shots whose record is one constant value.</summary>
    public bool CutFlatRecords { get; init; } = true;
    /// <summary>Cut shots with samples at or beyond the range of the digitiser.</summary>
    public bool CutSaturated { get; init; } = true;

    /// <summary>The same bins and blocks, every shot kept.</summary>
    public ReductionSettings WithoutCuts() =>
        this with { UnlockedBeyondHz = null, MonitorOutlierBeyond = null, TriggerMarkWithinSeconds = null, CutFlatRecords = false, CutSaturated = false };
}
