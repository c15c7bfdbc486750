using Pipeline.Statistics;

namespace Pipeline.Fitting;

/// <summary>Profile-likelihood intervals: where the objective, all other parameters fitted anew, has risen by one.</summary>
/// <remarks>68.27 % for one parameter (Wilks 1938; from memory). Counting, background and causes only: the scatter of the yield between shots is in the
/// errors by resampling. Taken for every parameter, so that nobody has to judge whether a profile is parabolic.</remarks>
static class ShapeProfile
{
    const double Rise = 1, Precision = 1e-4, Tolerance = 1e-6;
    const int Most = 25;

    /// <summary>The parameters of a search, and the lowest objective met on the way: below that of the search, it was no minimum.</summary>
    public static (ShapeParameter[] Parameters, double Lowest) Of(ShapeSearch search)
    {
        double lowest = search.Best.Objective;
        var parameters = new ShapeParameter[search.Problem.Own];
        for (int k = 0; k < parameters.Length; k++)
        {
            ShapeCoordinate coordinate = search.Family.Coordinates[k];
            double low = End(search, k, -1, ref lowest), high = End(search, k, 1, ref lowest);
            parameters[k] = new ShapeParameter(coordinate.Name, coordinate.Unit, search.Best.Parameters[k], low, high);
        }
        return (parameters, lowest);
    }

    /// <summary>Bracketed search for the rise of one; the bound of the parameter where it is reached before.</summary>
    static double End(ShapeSearch search, int k, int side, ref double lowest)
    {
        (ShapeCoordinate coordinate, double[] from, double best) = (search.Family.Coordinates[k], search.Best.Parameters, search.Best.Parameters[k]);
        double reach = side < 0 ? best - coordinate.Low : coordinate.High - best, sigma = search.Sigma(k);
        if (reach <= 0) return best;
        double step = Math.Min(sigma > 0 && double.IsFinite(sigma) ? sigma : 0.01 * reach, reach), inside = 0, outside = double.PositiveInfinity;
        for (int round = 0; round < Most; round++)
        {
            PoissonFit held = search.Problem.FindHeld(from, k, best + side * step, Tolerance);
            double rise = held.Objective - search.Best.Objective;
            lowest = Math.Min(lowest, held.Objective);
            if (Math.Abs(rise - Rise) < Precision) break;
            if (rise < Rise) (inside, from) = (step, held.Parameters);
            else outside = step;
            if (inside >= reach) return side < 0 ? coordinate.Low : coordinate.High;
            double next = step * Math.Sqrt(Rise / Math.Max(rise, 0.05));
            if (next <= inside || next >= outside) next = double.IsFinite(outside) ? 0.5 * (inside + outside) : 2 * inside;
            step = Math.Min(next, reach);
        }
        return best + side * step;
    }
}
