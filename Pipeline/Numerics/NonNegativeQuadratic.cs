using System.Buffers;

namespace Pipeline.Numerics;

/// <summary>Minimises x^T H x / 2 - g^T x with some variables bounded below by zero.</summary>
/// <remarks>Active set on the normal equations, after Lawson and Hanson (1974) in the form of Bro and de Jong
/// (J. Chemometrics 11, 393, 1997): it always ends, but moves one variable a step. Before it all variables that stand on the wrong side
/// are exchanged at once, after Portugal, Judice and Vicente (Math. Comp. 63, 625, 1994): from the solution of a similar problem this needs a
/// fifth of the steps, and mostly leaves nothing to do.</remarks>
sealed class NonNegativeQuadratic
{
    readonly int _n;
    readonly int _bounded;
    readonly double[] _trial;
    readonly int[] _index;
    /// <summary>Variables that rounding put back on their bound the moment they entered: not tried again until another one moves.</summary>
    readonly bool[] _refused;
    readonly bool[] _wrong;
    readonly double[] _start;

    /// <summary>Exchanges that may leave as many variables on the wrong side as before: the published choice.</summary>
    const int SpareExchanges = 3;

    /// <param name="n">Number of variables.</param>
    /// <param name="bounded">The first so many are bounded below by zero; the rest are free.</param>
    public NonNegativeQuadratic(int n, int bounded)
    {
        if (bounded < 0 || bounded > n) throw new ArgumentOutOfRangeException(nameof(bounded), bounded, $"must lie in [0, {n}]");
        (_n, _bounded) = (n, bounded);
        _trial = new double[n];
        _index = new int[n];
        _refused = new bool[n];
        _wrong = new bool[n];
        _start = new double[n];
        X = new double[n];
        Passive = new bool[n];
    }

    /// <summary>[n] the solution; on entry to <see cref="Solve"/> the start.</summary>
    public double[] X { get; }

    /// <summary>[n] which variables are away from their bound.</summary>
    public bool[] Passive { get; }

    /// <summary>Copies the state of a solved problem of the same size, as a start.</summary>
    public void StartFrom(NonNegativeQuadratic other)
    {
        other.X.CopyTo(X, 0);
        other.Passive.CopyTo(Passive, 0);
    }

    /// <param name="h">[n * n] symmetric, row-major, positive definite.</param>
    /// <param name="g">[n].</param>
    /// <returns>False where the steps ran out or H is singular to working precision; X is then feasible but not optimal.</returns>
    public bool Solve(double[] h, ReadOnlySpan<double> g)
    {
        for (int i = _bounded; i < _n; i++) Passive[i] = true;
        double scale = 0;
        foreach (double v in g) scale = Math.Max(scale, Math.Abs(v));
        double tolerance = 1e-10 * scale;
        if (ExchangeBlocks(h, g, tolerance)) return true;
        Array.Clear(_refused);
        int entered = -1;
        for (int outer = 0; outer < 6 * _n + 10; outer++)
        {
            if (!MoveToFeasible(h, g)) return false;
            if (entered >= 0 && !Passive[entered]) _refused[entered] = true;
            else Array.Clear(_refused);
            entered = MostPromising(h, g, tolerance);
            if (entered < 0) return true;
            Passive[entered] = true;
        }
        return false;
    }

    /// <summary>Exchanges every variable that is on the wrong side, while that leaves fewer of them.</summary>
    /// <returns>Whether none is left; if not, X is feasible.</returns>
    bool ExchangeBlocks(double[] h, ReadOnlySpan<double> g, double tolerance)
    {
        (int fewest, int spare) = (int.MaxValue, SpareExchanges);
        X.CopyTo(_start);
        while (true)
        {
            int m = SolvePassive(h, g), wrong = 0;
            if (m < 0) break;
            Array.Clear(X);
            for (int k = 0; k < m; k++) X[_index[k]] = _trial[k];
            for (int i = 0; i < _bounded; i++)
            {
                _wrong[i] = Passive[i] ? X[i] <= 0 : g[i] - Cholesky.Dot(h.AsSpan(i * _n, _n), X) > tolerance;
                if (_wrong[i]) wrong++;
            }
            if (wrong == 0) return true;
            if (wrong < fewest) (fewest, spare) = (wrong, SpareExchanges);
            else if (--spare < 0) break;
            for (int i = 0; i < _bounded; i++) Passive[i] ^= _wrong[i];
        }
        _start.CopyTo(X);
        for (int i = 0; i < _bounded; i++) Passive[i] = X[i] > 0;
        return false;
    }

    /// <summary>Solves on the passive set, and takes variables out until all bounded ones are positive.</summary>
    bool MoveToFeasible(double[] h, ReadOnlySpan<double> g)
    {
        for (int inner = 0; inner <= _n + 1; inner++)
        {
            int m = SolvePassive(h, g);
            if (m < 0) return false;
            double step = 1;
            for (int k = 0; k < m; k++)
            {
                int i = _index[k];
                if (i < _bounded && _trial[k] <= 0) step = Math.Min(step, X[i] <= 0 ? 0 : X[i] / (X[i] - _trial[k]));
            }
            for (int i = 0; i < _n; i++) if (!Passive[i]) X[i] = 0;
            for (int k = 0; k < m; k++) X[_index[k]] += step * (_trial[k] - X[_index[k]]);
            if (step >= 1) return true;
            for (int k = 0; k < m; k++)
            {
                int i = _index[k];
                if (i < _bounded && _trial[k] <= 0 && X[i] <= 1e-14 * Math.Abs(_trial[k]) + 1e-300) (Passive[i], X[i]) = (false, 0);
            }
        }
        return false;
    }

    int SolvePassive(double[] h, ReadOnlySpan<double> g)
    {
        int m = 0;
        for (int i = 0; i < _n; i++) if (Passive[i]) _index[m++] = i;
        double[] factor = ArrayPool<double>.Shared.Rent(m * m);
        for (int a = 0; a < m; a++)
        {
            ReadOnlySpan<double> row = h.AsSpan(_index[a] * _n, _n);
            Span<double> packed = factor.AsSpan(a * m, a + 1);
            for (int b = 0; b < packed.Length; b++) packed[b] = row[_index[b]];
            _trial[a] = g[_index[a]];
        }
        bool regular = Cholesky.Factor(factor, m, m);
        if (regular) Cholesky.Solve(factor, m, m, _trial);
        ArrayPool<double>.Shared.Return(factor);
        return regular ? m : -1;
    }

    int MostPromising(double[] h, ReadOnlySpan<double> g, double tolerance)
    {
        (int best, double largest) = (-1, tolerance);
        for (int i = 0; i < _bounded; i++)
        {
            if (Passive[i] || _refused[i]) continue;
            double descent = g[i] - Cholesky.Dot(h.AsSpan(i * _n, _n), X);
            if (descent > largest) (best, largest) = (i, descent);
        }
        return best;
    }
}
