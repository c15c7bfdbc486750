namespace Pipeline.Reduction;

/// <summary>The four kinds of shot: probe on or off times ablation on or off.</summary>
public enum ShotKind
{
    /// <summary>Probe on, ablation on.</summary>
    Signal,
    /// <summary>Probe on, no ablation: scattered light and dark.</summary>
    NoAblation,
    /// <summary>Probe blocked, ablation on: flash and dark.</summary>
    ProbeBlocked,
    /// <summary>Neither.</summary>
    Dark,
}

/// <summary>Housekeeping of one shot; NaN where the file has no such channel.</summary>
/// <param name="Number">The shot's own number in the file.</param>
/// <param name="Kind">Which of the four kinds.</param>
/// <param name="Condition">Name of the condition, "off", "on", ...</param>
/// <param name="ProbeMonitor">V.</param>
/// <param name="AblationMonitor">V.</param>
/// <param name="DetuningReadback">Laser detuning as read back, Hz.</param>
public readonly record struct ShotInfo(
    long Number, ShotKind Kind, string Condition, double ProbeMonitor, double AblationMonitor, double DetuningReadback)
{
    /// <summary>Number of the point of a scan; null where the file does not say.</summary>
    public int? Point { get; init; }
    /// <summary>Whether an earlier shot of the file has the same number.</summary>
    public bool Repeated { get; init; }
}
