namespace Pipeline.Predictions;

/// <summary>What one molecule leaves in the bins.</summary>
/// <param name="room">Most entries that one molecule can need.</param>
sealed class Footprint(int room)
{
    readonly int[] _bins = new int[room];
    readonly double[] _counts = new double[room], _whole = new double[room];

    public int Count { get; private set; }
    public ReadOnlySpan<int> Bins => _bins.AsSpan(0, Count);
    /// <summary>Expected counts in each of the bins.</summary>
    public ReadOnlySpan<double> Counts => _counts.AsSpan(0, Count);
    /// <summary>Counts before they were shared out over time.</summary>
    public ReadOnlySpan<double> Whole => _whole.AsSpan(0, Count);

    public void Clear() => Count = 0;

    public void Add(int bin, double counts, double whole)
    {
        (_bins[Count], _counts[Count], _whole[Count]) = (bin, counts, whole);
        Count++;
    }
}

/// <summary>The instrument as single molecules see it.</summary>
interface IMoleculeResponse
{
    /// <summary>Most bins that one molecule can reach.</summary>
    int Room { get; }

    /// <summary>Fills in what molecule <paramref name="k"/> leaves.</summary>
    void Fill(Crossings crossings, int k, Footprint footprint);
}
