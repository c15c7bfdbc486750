namespace Pipeline.Reduction;

/// <summary>Consecutive shots as recorded. Samples are either integer codes or real values, row after row.</summary>
public sealed class ShotBlock
{
    /// <param name="firstShot">Position of the first shot in the file.</param>
    /// <param name="shots">[shots] housekeeping.</param>
    /// <param name="codes">[shots * samples] codes as recorded.</param>
    public ShotBlock(int firstShot, IReadOnlyList<ShotInfo> shots, int[] codes) : this(firstShot, shots, codes.Length) => Codes = codes;

    /// <param name="firstShot">Position of the first shot in the file.</param>
    /// <param name="shots">[shots] housekeeping.</param>
    /// <param name="values">[shots * samples] real values as recorded.</param>
    public ShotBlock(int firstShot, IReadOnlyList<ShotInfo> shots, double[] values) : this(firstShot, shots, values.Length) => Values = values;

    ShotBlock(int firstShot, IReadOnlyList<ShotInfo> shots, int length)
    {
        if (shots.Count == 0 || length % shots.Count != 0)
            throw new ArgumentOutOfRangeException(nameof(shots), shots.Count, $"must divide the {length} samples");
        FirstShot = firstShot;
        Shots = shots;
        Samples = length / shots.Count;
    }

    public int FirstShot { get; }
    public IReadOnlyList<ShotInfo> Shots { get; }
    /// <summary>Samples a shot.</summary>
    public int Samples { get; }
    public int[]? Codes { get; }
    public double[]? Values { get; }
}
