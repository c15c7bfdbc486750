namespace Pipeline.Predictions;

/// <summary>What one row of a list of simulated molecules stands for.</summary>
public enum MoleculeWeighting
{
    /// <summary>A row is a molecule that crosses a plane at its time; its weight counts molecules a shot.</summary>
    Crossings,
    /// <summary>A row is a molecule that is at its position at one instant; its weight counts molecules a shot.</summary>
    Snapshot,
}

/// <summary>Simulated molecules, each at a known time and place. Arrays share one length.</summary>
public sealed class MoleculeList
{
    /// <param name="time">[n] s after the trigger.</param>
    /// <param name="z">[n] distance from the emission point along the beam, m.</param>
    /// <param name="vz">[n] m/s, positive.</param>
    /// <param name="x">[n] m.</param>
    /// <param name="y">[n] m.</param>
    /// <param name="vx">[n] m/s.</param>
    /// <param name="vy">[n] m/s.</param>
    /// <param name="weight">[n] molecules a shot.</param>
    /// <param name="weighting">What a row stands for.</param>
    public MoleculeList(double[] time, double[] z, double[] vz, double[] x, double[] y, double[] vx, double[] vy, double[] weight,
        MoleculeWeighting weighting)
    {
        foreach (double[] column in (double[][])[z, vz, x, y, vx, vy, weight])
            if (column.Length != time.Length) throw new ArgumentOutOfRangeException(nameof(time), column.Length, $"all columns must hold {time.Length} rows");
        (Time, Z, Vz, X, Y, Vx, Vy, Weight, Weighting) = (time, z, vz, x, y, vx, vy, weight, weighting);
    }

    public double[] Time { get; }
    public double[] Z { get; }
    public double[] Vz { get; }
    public double[] X { get; }
    public double[] Y { get; }
    public double[] Vx { get; }
    public double[] Vy { get; }
    public double[] Weight { get; }
    public MoleculeWeighting Weighting { get; }
    public int Count => Time.Length;

    /// <summary>The same molecules in the order of their speed: tables by speed are then read from end to end, several times as fast.</summary>
    public MoleculeList BySpeed()
    {
        int[] order = [.. Enumerable.Range(0, Count)];
        Array.Sort((double[])Vz.Clone(), order);
        double[] Sorted(double[] column) => [.. order.Select(k => column[k])];
        return new MoleculeList(Sorted(Time), Sorted(Z), Sorted(Vz), Sorted(X), Sorted(Y), Sorted(Vx), Sorted(Vy), Sorted(Weight), Weighting);
    }
}
