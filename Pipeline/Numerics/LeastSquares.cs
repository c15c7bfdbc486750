namespace Pipeline.Numerics;

/// <summary>Residuals of a least-squares problem.</summary>
/// <param name="parameters">[p] parameters.</param>
/// <param name="residuals">[n] to be filled.</param>
/// <param name="jacobian">[n * p] row-major derivatives of the residuals, to be filled; empty where only residuals are wanted.</param>
delegate void ResidualFunction(ReadOnlySpan<double> parameters, Span<double> residuals, Span<double> jacobian);

/// <summary>How a least-squares search ended.</summary>
/// <param name="Parameters">[p].</param>
/// <param name="SumOfSquares">At the end.</param>
/// <param name="Converged">True where the gradient vanished relative to the residuals, or the step to working precision.</param>
/// <param name="Iterations">Accepted steps.</param>
/// <param name="Normal">[p * p] J^T J at the end, row-major.</param>
/// <param name="AtBound">[p] which parameters ended on a bound.</param>
sealed record LeastSquaresResult(
    double[] Parameters, double SumOfSquares, bool Converged, int Iterations, double[] Normal, bool[] AtBound);

/// <summary>Bounded nonlinear least squares.</summary>
/// <remarks>Levenberg (1944), Marquardt (1963), with the scaling and gain control of Moré (1978); steps are found by orthogonal
/// factorisation of the Jacobian, and are projected on the bounds.</remarks>
static class LeastSquares
{
    const int MostSteps = 2000;

    /// <summary>Gradient at which a search ends by itself, relative to residuals and derivatives: near working precision.</summary>
    public const double Tightest = 1e-13;

    /// <param name="residual">The problem.</param>
    /// <param name="count">Number of residuals, at least the number of parameters.</param>
    /// <param name="start">[p], inside the bounds.</param>
    /// <param name="low">[p] lower bounds, or null.</param>
    /// <param name="high">[p] upper bounds, or null.</param>
    /// <param name="tolerance">Gradient at which the search ends, relative to residuals and derivatives.</param>
    public static LeastSquaresResult Minimise(
        ResidualFunction residual, int count, double[] start, double[]? low = null, double[]? high = null, double tolerance = Tightest)
    {
        if (count < start.Length) throw new ArgumentOutOfRangeException(nameof(count), count, $"needs at least {start.Length} residuals");
        var search = new LeastSquaresSearch(residual, count, start, low, high, tolerance);
        for (int step = 0; step < MostSteps && !search.Finished; step++) search.Step();
        return search.Result();
    }
}
