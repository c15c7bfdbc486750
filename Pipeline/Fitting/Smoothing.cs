using Pipeline.Numerics;

namespace Pipeline.Fitting;

/// <summary>Second differences, and how strongly they are held down.</summary>
static class Smoothing
{
    /// <summary>Strength at which the penalty of an average cell weighs as much as its data.</summary>
    public static double UnitStrength(Design design)
    {
        double[] flat = new double[design.Variables];
        double[] weights = [.. design.Means(flat).Select((m, i) => 1 / design.Window.Variance(i, design.Window.Total[i]))];
        var h = new double[design.Variables * design.Variables];
        design.AddNormal(weights, h);
        double trace = 0;
        for (int c = 0; c < design.Cells; c++) trace += h[c * design.Variables + c];
        return Math.Max(trace, double.Epsilon) / (6.0 * design.Cells);
    }

    /// <summary>[variables * variables] strength times D^T D over the molecules, a trace of it on the diagonal, and much of it where a
    /// cell is not seen, so that smoothness does not invent molecules there.</summary>
    public static double[] Penalty(Design design, double strength)
    {
        int n = design.Variables;
        var p = new double[n * n];
        ReadOnlySpan<double> stencil = [1, -2, 1];
        for (int c = 0; c + 2 < design.Cells; c++)
            for (int a = 0; a < 3; a++)
                for (int b = 0; b < 3; b++) p[(c + a) * n + c + b] += strength * stencil[a] * stencil[b];
        for (int c = 0; c < design.Cells; c++) p[c * n + c] += design.Blind[c] ? 1e6 * strength + 1 : 1e-9 * strength + 1e-12;
        return p;
    }

    /// <summary>The strength of the ladder with the least estimated risk, with the weights of a pilot fit.</summary>
    public static double ChooseStrength(Design design, PenalisedFit pilot, double unit, double[] ladder)
    {
        int n = design.Variables;
        double[] net = [.. design.Window.Total.Select((t, i) => t - design.Window.Background[i])];
        double[] information = new double[n * n];
        design.AddNormal(pilot.Weights, information);
        double[] g = design.Project(pilot.Weights, net);
        var solver = new NonNegativeQuadratic(n, design.Cells);
        solver.StartFrom(pilot.Solver);
        (double best, double least) = (1, double.PositiveInfinity);
        foreach (double strength in ladder.Reverse())
        {
            double[] h = WithPriors(information, Penalty(design, strength * unit), design);
            if (!solver.Solve(h, g)) continue;
            double[] means = design.Means(solver.X);
            double risk = 2 * Trace(Influence(h, information, solver.Passive, n));
            for (int i = 0; i < means.Length; i++) risk += pilot.Weights[i] * Square(design.Window.Total[i] - means[i]);
            if (risk < least) (best, least) = (strength, risk);
        }
        return best;
    }

    /// <summary>Trace of the influence, and the resolution matrix of the molecules.</summary>
    public static double EffectiveParameters(Design design, PenalisedFit fit, out double[][] resolution)
    {
        int n = design.Variables;
        var information = new double[n * n];
        design.AddNormal(fit.Weights, information);
        double[][] influence = Influence(fit.Hessian, information, fit.Solver.Passive, n);
        resolution = [.. influence.Take(design.Cells).Select(row => row[..design.Cells])];
        return Trace(influence);
    }

    /// <summary>[n][n] change of the solution with a change of the truth, on the passive set.</summary>
    static double[][] Influence(double[] h, double[] information, bool[] passive, int n)
    {
        int[] index = [.. Enumerable.Range(0, n).Where(k => passive[k])];
        int m = index.Length;
        var factor = new double[m * m];
        for (int a = 0; a < m; a++)
            for (int b = 0; b <= a; b++) factor[a * m + b] = h[index[a] * n + index[b]];
        double[][] influence = [.. Enumerable.Range(0, n).Select(_ => new double[n])];
        if (!Cholesky.Factor(factor, m, m)) return influence;
        var column = new double[m];
        for (int c = 0; c < n; c++)
        {
            for (int a = 0; a < m; a++) column[a] = information[index[a] * n + c];
            Cholesky.Solve(factor, m, m, column);
            for (int a = 0; a < m; a++) influence[index[a]][c] = column[a];
        }
        return influence;
    }

    static double[] WithPriors(double[] information, double[] penalty, Design design)
    {
        double[] h = [.. information.Zip(penalty, (a, b) => a + b)];
        for (int k = design.Cells; k < design.Variables; k++) h[k * design.Variables + k] += 1;
        return h;
    }

    static double Trace(double[][] matrix) => matrix.Select((row, i) => row[i]).Sum();
    static double Square(double x) => x * x;
}
