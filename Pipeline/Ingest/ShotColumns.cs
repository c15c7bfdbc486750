namespace Pipeline.Ingest;

/// <summary>Where an HDF5 file keeps the housekeeping of its shots.</summary>
public enum HousekeepingPlace
{
    /// <summary>Columns are paths of datasets with one value a shot.</summary>
    Datasets,
    /// <summary>Columns are fields of one table.</summary>
    Table,
    /// <summary>Columns are attributes of one dataset or group, with one value a shot or one for all.</summary>
    Attributes,
    /// <summary>Columns stand in a CSV file beside the run.</summary>
    File,
}

/// <summary>Where the housekeeping of each shot stands: dataset paths, fields, attributes, or column names of the shot table. Null: the file
/// has none.</summary>
public sealed record ShotColumns
{
    public HousekeepingPlace Place { get; init; }
    /// <summary>Path of the table, of the holder of the attributes, or name of the CSV file.</summary>
    public string? PlaceName { get; init; }
    /// <summary>How the CSV file is written.</summary>
    public CsvDialect Dialect { get; init; } = new();
    public string? Number { get; init; }
    /// <summary>Label of the kind; null where it follows from <see cref="ProbeOn"/> and <see cref="AblationOn"/>.</summary>
    public string? Kind { get; init; }
    /// <summary>Whether the probe reached the molecules, as yes or no.</summary>
    public string? ProbeOn { get; init; }
    /// <summary>Whether the source was fired, as yes or no.</summary>
    public string? AblationOn { get; init; }
    /// <summary>Null: every shot belongs to condition <see cref="OnlyCondition"/>.</summary>
    public string? Condition { get; init; }
    public string? OnlyCondition { get; init; }
    /// <summary>Condition by the file's own label; a label that is not here is itself the condition.</summary>
    public IReadOnlyDictionary<string, string> ConditionNames { get; init; } = new Dictionary<string, string>(StringComparer.Ordinal);
    public string? ProbeMonitor { get; init; }
    public string? AblationMonitor { get; init; }
    public string? Detuning { get; init; }
    /// <summary>Number of the point of a scan.</summary>
    public string? Point { get; init; }
    /// <summary>Hz in one unit of the detuning column.</summary>
    public double DetuningFactor { get; init; } = 1;
    /// <summary>Labels in the file for signal, no ablation, probe blocked and dark shots, in this order.</summary>
    public required IReadOnlyList<string> KindLabels { get; init; }

    /// <summary>Columns of numbers, in the order of <see cref="ShotTable"/>.</summary>
    internal IReadOnlyList<string?> Numeric => [Number, ProbeMonitor, AblationMonitor, Detuning, Point];

    /// <summary>Columns of labels, in the order of <see cref="ShotTable"/>.</summary>
    internal IReadOnlyList<string?> Labels => [Kind, ProbeOn, AblationOn, Condition];
}
