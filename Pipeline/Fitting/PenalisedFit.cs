using Pipeline.Numerics;
using Pipeline.Statistics;

namespace Pipeline.Fitting;

/// <summary>Minimises deviance + priors + x^T P x over molecules &gt;= 0 and free amplitudes of causes.</summary>
/// <remarks>Fisher scoring: each round is a non-negative quadratic problem with the weights of the last means; the fixed point is the
/// penalised maximum of the likelihood. Analog bins count by their chi-square.</remarks>
sealed class PenalisedFit
{
    const int MostRounds = 40;
    readonly Design _design;
    readonly double[] _penalty;
    readonly NonNegativeQuadratic _solver;

    /// <param name="design">The linear model.</param>
    /// <param name="penalty">[variables * variables] P, positive semi-definite.</param>
    public PenalisedFit(Design design, double[] penalty)
    {
        (_design, _penalty) = (design, penalty);
        _solver = new NonNegativeQuadratic(design.Variables, design.Cells);
    }

    /// <summary>[variables] the solution.</summary>
    public double[] X => _solver.X;
    public NonNegativeQuadratic Solver => _solver;
    public double[] Means { get; private set; } = [];
    /// <summary>[bins] inverse variances of the last round.</summary>
    public double[] Weights { get; private set; } = [];
    /// <summary>[variables * variables] A^T W A + P + priors of the last round.</summary>
    public double[] Hessian { get; private set; } = [];
    public bool Converged { get; private set; }
    /// <summary>Deviance of the data and of the priors of the causes, without the penalty.</summary>
    public double Deviance { get; private set; }

    /// <summary>What is minimised, at the solution.</summary>
    public double Objective => ObjectiveAt(X);

    /// <summary>A flat spectrum that holds the net counts, as a start.</summary>
    public void StartFlat()
    {
        double[] ones = new double[_design.Variables];
        Array.Fill(ones, 1, 0, _design.Cells);
        FitWindow window = _design.Window;
        double signal = _design.Means(ones).Sum() - window.Background.Sum();
        double net = Math.Max(window.Total.Sum() - window.Background.Sum(), 0.01 * window.Total.Sum() + 1);
        for (int c = 0; c < _design.Cells; c++) (X[c], _solver.Passive[c]) = (signal > 0 ? net / signal : 1, true);
    }

    public void Solve()
    {
        double objective = double.PositiveInfinity;
        for (int round = 0; round < MostRounds; round++)
        {
            double[] before = [.. X];
            Scale(_design.Means(X));
            double[] g = _design.Project(Weights, Net());
            bool solved = _solver.Solve(Hessian, g);
            double next = ObjectiveAt(X);
            for (int half = 0; half < 12 && !(next <= objective * (1 + 1e-12)); half++)
            {
                for (int k = 0; k < X.Length; k++) X[k] = 0.5 * (X[k] + before[k]);
                next = ObjectiveAt(X);
            }
            bool settled = Math.Abs(objective - next) <= 1e-9 * (1 + Math.Abs(next));
            objective = next;
            if (!settled || !solved) continue;
            Converged = true;
            break;
        }
        Means = _design.Means(X);
        Deviance = DevianceAt(Means) + PriorAt(X);
    }

    /// <summary>[bins] totals minus background.</summary>
    double[] Net() => [.. _design.Window.Total.Select((t, i) => t - _design.Window.Background[i])];

    void Scale(double[] means)
    {
        FitWindow window = _design.Window;
        Weights = [.. means.Select((m, i) => 1 / window.Variance(i, m))];
        Hessian = [.. _penalty];
        _design.AddNormal(Weights, Hessian);
        for (int k = _design.Cells; k < _design.Variables; k++) Hessian[k * _design.Variables + k] += 1;
    }

    double ObjectiveAt(double[] x) => DevianceAt(_design.Means(x)) + PriorAt(x) + QuadraticForm(x);

    double PriorAt(double[] x) => x.Skip(_design.Cells).Sum(a => a * a);

    double QuadraticForm(double[] x)
    {
        double sum = 0;
        for (int a = 0; a < x.Length; a++)
            if (x[a] != 0) sum += x[a] * Cholesky.Dot(_penalty.AsSpan(a * x.Length, x.Length), x);
        return sum;
    }

    double DevianceAt(double[] means)
    {
        FitWindow window = _design.Window;
        double sum = 0;
        for (int i = 0; i < means.Length; i++)
        {
            double d = window.Total[i] - means[i];
            // counts with variance beyond Poisson: the deviance whose slope is (total - mean) / (mean + extra), as the steps have it
            sum += window.TotalVariance is null
                ? PoissonDeviance.Of(window.Total[i] + window.ExtraVariance[i], Math.Max(means[i], 1e-3) + window.ExtraVariance[i])
                : d * d / window.Variance(i, means[i]);
        }
        return sum;
    }
}
