using Pipeline.Numerics;
using Pipeline.Quantities;

namespace Pipeline.Fitting;

/// <summary>Smallest and largest value of a linear quantity over all non-negative spectra that the data allow: no smoothness, no prior.</summary>
/// <remarks>A spectrum is allowed where its chi-square is within a threshold of the least over all non-negative spectra (one-at-a-time strict
/// bounds: Rust and Burrus, 1972; Kuusela and Stark, Ann. Appl. Stat. 11, 1671, 2017, from memory). The quantile of chi-square with one degree of freedom is
/// too small a threshold where many cells sit at zero: each of them fits an upward fluctuation of its own, and an empty range would seldom
/// be found empty. So the threshold of each end is the quantile of the same statistic in data drawn from the allowed spectrum at that end, as
/// in the construction of Feldman and Cousins (PRD 57, 3873, 1998) with everything else profiled. Weights stay those of the main fit.</remarks>
sealed class StrictBounds
{
    const int Draws = 120;
    const int Bisections = 40;
    const int MostRounds = 4;
    readonly Design _design;
    readonly double[] _weights, _variance, _hessian;
    readonly NonNegativeQuadratic _start;

    /// <param name="design">The linear model.</param>
    /// <param name="means">[bins] expected totals of a fit, for the weights.</param>
    public StrictBounds(Design design, double[] means)
    {
        _design = design;
        _variance = [.. means.Select((m, i) => design.Window.Variance(i, Math.Max(m, design.Window.Background[i])))];
        _weights = [.. _variance.Select(v => 1 / v)];
        int n = design.Variables;
        _hessian = new double[n * n];
        design.AddNormal(_weights, _hessian);
        double trace = Enumerable.Range(0, design.Cells).Max(c => _hessian[c * n + c]);
        for (int c = 0; c < design.Cells; c++) _hessian[c * n + c] += (design.Blind[c] ? 1e6 : 1e-10) * trace;
        for (int k = design.Cells; k < n; k++) _hessian[k * n + k] += 1;
        _start = new NonNegativeQuadratic(n, design.Cells);
        _start.Solve(_hessian, Projected(Net(design.Window.Total)));
    }

    /// <summary>The range of a quantity.</summary>
    /// <param name="direction">[cells] weight of each cell's molecules, none negative.</param>
    /// <param name="confidence">In (0, 1).</param>
    /// <param name="seed">Of the draws.</param>
    public Interval Of(double[] direction, double confidence, int seed)
    {
        double[] g = Projected(Net(_design.Window.Total)), q = [.. direction, .. new double[_design.Variables - direction.Length]];
        double usual = MathNet.Numerics.Distributions.ChiSquared.InvCDF(1, confidence);
        double End(bool low)
        {
            (double end, double[] spectrum) = Extreme(g, q, low, usual);
            double threshold = usual;
            for (int round = 0; round < MostRounds; round++)
            {
                double needed = Math.Max(Threshold(spectrum, q, end, confidence, seed), Threshold(Gathered(spectrum, q, end), q, end, confidence, seed));
                if (needed <= 1.02 * threshold) break;
                threshold = needed;
                (end, spectrum) = Extreme(g, q, low, threshold);
            }
            return end;
        }
        return new Interval(End(low: true), End(low: false), confidence);
    }

    double[] Net(double[] total) => [.. total.Select((t, i) => t - _design.Window.Background[i])];

    double[] Projected(double[] net) => _design.Project(_weights, net);

    NonNegativeQuadratic Solver()
    {
        var solver = new NonNegativeQuadratic(_design.Variables, _design.Cells);
        solver.StartFrom(_start);
        return solver;
    }

    /// <summary>x^T H x - 2 g^T x: chi-square less that of nothing.</summary>
    double Squares(double[] x, double[] g)
    {
        int n = x.Length;
        double sum = 0;
        for (int a = 0; a < n; a++) if (x[a] != 0) sum += x[a] * (Cholesky.Dot(_hessian.AsSpan(a * n, n), x) - 2 * g[a]);
        return sum;
    }

    /// <summary>The least or largest quantity whose chi-square is within the threshold, and its spectrum: along spectra of least chi-square plus a price
    /// on the quantity.</summary>
    (double Value, double[] Spectrum) Extreme(double[] g, double[] q, bool low, double threshold)
    {
        NonNegativeQuadratic solver = Solver();
        solver.Solve(_hessian, g);
        double least = Squares(solver.X, g);
        if (low && Empty(g, q) is var (empty, squares) && squares - least <= threshold) return (0, empty);
        double Rise(double price)
        {
            solver.Solve(_hessian, Priced(g, q, low ? price : -price));
            return Squares(solver.X, g) - least;
        }
        // in the units in which a price of one standard error costs one unit of chi-square
        int first = Array.FindIndex(q, w => w > 0);
        double unit = 1 / Math.Max(Cholesky.Dot(solver.X, q), q[first] / Math.Sqrt(_hessian[first * q.Length + first])), cheap = 0, dear = unit;
        while (Rise(dear) < threshold && dear < 1e12 * unit) (cheap, dear) = (dear, 4 * dear);
        for (int k = 0; k < Bisections && dear - cheap > 1e-4 * dear; k++)
        {
            double middle = 0.5 * (cheap + dear);
            if (Rise(middle) < threshold) cheap = middle;
            else dear = middle;
        }
        Rise(cheap);
        return (Cholesky.Dot(solver.X, q), [.. solver.X]);
    }

    /// <summary>The best spectrum that has nothing of the quantity, and its chi-square less that of nothing.</summary>
    (double[] Spectrum, double Squares) Empty(double[] g, double[] q)
    {
        int n = q.Length;
        double[] h = [.. _hessian];
        for (int c = 0; c < n; c++) if (q[c] > 0) h[c * n + c] *= 1e9;
        NonNegativeQuadratic solver = Solver();
        solver.Solve(h, g);
        double[] x = [.. solver.X.Select((v, c) => q[c] > 0 ? 0 : v)];
        return (x, Squares(x, g));
    }

    /// <summary>A spectrum with all of the quantity in the cell that the data know best, where it leaves the most room in the others.</summary>
    double[] Gathered(double[] spectrum, double[] q, double value)
    {
        int best = Enumerable.Range(0, _design.Cells).MaxBy(c => q[c] * _hessian[c * q.Length + c] * (_design.Blind[c] ? 0 : 1));
        return [.. spectrum.Select((x, c) => q[c] <= 0 ? x : c == best ? value / q[c] : 0)];
    }

    static double[] Priced(double[] g, double[] q, double price) => [.. g.Select((v, k) => v - price * q[k])];

    /// <summary>Quantile of how much chi-square rises when a drawn run is held to the value from which it was drawn.</summary>
    double Threshold(double[] spectrum, double[] q, double value, double confidence, int seed)
    {
        double[] means = _design.Means([.. spectrum.Take(_design.Cells), .. new double[_design.Variables - _design.Cells]]);
        var rises = new double[Draws];
        Parallel.For(0, Draws, k =>
        {
            var random = new MathNet.Numerics.Random.Xoshiro256StarStar(unchecked(seed * 31 + k), threadSafe: false);
            rises[k] = HeldRise(Projected(Net(Drawn(means, random))), q, value);
        });
        return rises.Order().ElementAt((int)(confidence * Draws));
    }

    /// <summary>A run with these means; common causes move together.</summary>
    double[] Drawn(double[] means, Random random)
    {
        double[] moved = [.. means];
        foreach (double[] cause in _design.Window.Causes)
        {
            double amplitude = MathNet.Numerics.Distributions.Normal.Sample(random, 0, 1);
            for (int i = 0; i < moved.Length; i++) moved[i] += amplitude * cause[i];
        }
        bool counts = _design.Window.TotalVariance is null;
        return [.. moved.Select((m, i) => counts && _design.Window.ExtraVariance[i] == 0
            ? MathNet.Numerics.Distributions.Poisson.Sample(random, Math.Max(m, 1e-12)) : MathNet.Numerics.Distributions.Normal.Sample(random, m, Math.Sqrt(_variance[i])))];
    }

    /// <summary>Least chi-square with the quantity held at a value, less the least of all: the largest of its dual function.</summary>
    double HeldRise(double[] g, double[] q, double value)
    {
        NonNegativeQuadratic solver = Solver();
        solver.Solve(_hessian, g);
        double least = Squares(solver.X, g), found = Cholesky.Dot(solver.X, q);
        if (value <= 0) return Empty(g, q).Squares - least;
        // the quantity falls as its price rises: bracket, then bisect
        double Excess(double price)
        {
            solver.Solve(_hessian, Priced(g, q, price));
            return Cholesky.Dot(solver.X, q) - value;
        }
        double sign = found > value ? 1 : -1, step = 1 / value, near = 0, far = sign * step;
        while (sign * Excess(far) > 0 && step < 1e9 / value) (near, step, far) = (far, 4 * step, sign * 4 * step);
        for (int k = 0; k < 12; k++)
        {
            double middle = 0.5 * (near + far);
            if (sign * Excess(middle) > 0) near = middle;
            else far = middle;
        }
        double price = 0.5 * (near + far), excess = Excess(price);
        return Math.Max(0, Squares(solver.X, g) + 2 * price * excess - least);
    }
}
