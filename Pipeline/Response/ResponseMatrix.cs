using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>Counts that one molecule of each velocity cell leaves in each bin, dead time apart. Each column knows where it is not zero.</summary>
public sealed class ResponseMatrix
{
    readonly double[][] _columns;
    readonly int[] _first;

    /// <param name="axis">Bins of the signal.</param>
    /// <param name="grid">Velocity cells.</param>
    /// <param name="columns">[cells][bins] counts for each molecule; zeros at either end are not kept.</param>
    public ResponseMatrix(SignalAxis axis, VelocityGrid grid, double[][] columns)
    {
        if (columns.Length != grid.Cells) throw new ArgumentOutOfRangeException(nameof(columns), columns.Length, $"must be {grid.Cells}");
        (Axis, Grid) = (axis, grid);
        _columns = new double[columns.Length][];
        _first = new int[columns.Length];
        for (int c = 0; c < columns.Length; c++)
        {
            if (columns[c].Length != axis.Bins) throw new ArgumentOutOfRangeException(nameof(columns), columns[c].Length, $"must have {axis.Bins} bins");
            int first = Math.Max(0, Array.FindIndex(columns[c], x => x != 0)), last = Array.FindLastIndex(columns[c], x => x != 0);
            _first[c] = first;
            _columns[c] = last < first ? [] : columns[c][first..(last + 1)];
        }
    }

    /// <summary>[cells + 1] recorded time at which molecules with the speed of each edge arrive in the mean, s after the trigger; null where arrival time
    /// does not tell the speed.</summary>
    public IReadOnlyList<double>? ArrivalTimes { get; init; }

    public SignalAxis Axis { get; }
    public VelocityGrid Grid { get; }

    /// <summary>First bin that a cell reaches.</summary>
    public int First(int cell) => _first[cell];

    /// <summary>Counts from <see cref="First"/> on.</summary>
    public ReadOnlySpan<double> Column(int cell) => _columns[cell];

    /// <summary>Counts for each molecule of a cell, over all bins.</summary>
    public double Sum(int cell) => _columns[cell].Sum();

    /// <summary>Whether another matrix of the same shape holds the same numbers.</summary>
    public bool SameAs(ResponseMatrix other)
    {
        for (int c = 0; c < _columns.Length; c++)
            if (_first[c] != other._first[c] || !_columns[c].AsSpan().SequenceEqual(other._columns[c])) return false;
        return true;
    }

    /// <summary>Expected counts: matrix times molecules.</summary>
    /// <param name="molecules">[cells].</param>
    /// <returns>[bins].</returns>
    public double[] Fold(ReadOnlySpan<double> molecules)
    {
        var signal = new double[Axis.Bins];
        for (int c = 0; c < _columns.Length; c++)
        {
            double n = molecules[c];
            if (n == 0) continue;
            for (int k = 0; k < _columns[c].Length; k++) signal[_first[c] + k] += n * _columns[c][k];
        }
        return signal;
    }
}
