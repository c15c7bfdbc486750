using System.Text.Json;
using Pipeline.Apparatus;
using Pipeline.Numerics;
using Pipeline.Quantities;
using Pipeline.Statistics;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.CrossChecks;

/// <summary>The program's statistics and numerics against those of SciPy, which shares no code with them: see scipy_values.py.</summary>
public class ScipyTests
{
    static readonly Lazy<JsonDocument> Values = new(() => JsonDocument.Parse(Python.Print(["Pipeline.Tests", "CrossChecks", "scipy_values.py"])));

    /// <remarks>The quantile meets its chance to 2e-8 of itself, which moves the limit by less than 1e-8 of itself.</remarks>
    [SkippableFact]
    public void CountInterval_ManyCounts_Agrees() => Each("poisson_intervals", 5, v =>
    {
        Interval central = CountInterval.Central((int)v[0], v[1]);
        Near(v[2], central.Low, 1e-8);
        Near(v[3], central.High, 1e-8);
        Near(v[4], CountInterval.Upper((int)v[0], v[1]), 1e-8);
    });

    /// <remarks>Tolerances of this and the next two: the documented errors.</remarks>
    [SkippableFact]
    public void ChiSquare_ManyTails_Agrees() => Each("chi_square", 3, v => Near(v[2], Tail.ChiSquare(v[0], v[1]), 2e-11));

    [SkippableFact]
    public void NoncentralChiSquare_ManyTails_Agrees() => Each("noncentral", 4, v => Near(v[3], Tail.NoncentralChiSquare(v[0], v[1], v[2]), 1e-10));

    [SkippableFact]
    public void Student_ManyTails_Agrees() => Each("student", 3, v => Near(v[2], Tail.StudentTwoSided(v[0], v[1]), v[0] >= 1 ? 1e-11 : 1e-8));

    /// <remarks>Documented: 1e-15 of the Gaussian's peak; the other is the rounding of far wings in either library.</remarks>
    [SkippableFact]
    public void Voigt_ManyShapes_Agrees() => Each("voigt", 4, v => Assert.Equal(v[3], Voigt.Density(v[0], v[1], v[2]), 1e-12 * v[3] + 1e-15 / v[1]));

    /// <remarks>Rounding of a difference between two integrals that are at most one.</remarks>
    [SkippableFact]
    public void EmissionPulse_ManyShapes_Agrees() => Each("exponential_gaussian", 5, v =>
    {
        var pulse = new ExponentialGaussianEmission { Width = new(v[1]), Tail = new(v[2]) };
        Assert.Equal(v[3], pulse.DensityAt(v[0]), 1e-12 * v[3] + 1e-15 / v[1]);
        Assert.Equal(v[4], pulse.CumulativeAt(v[0]), 1e-14);
    });

    /// <remarks>Two incomplete beta functions of some hundred terms.</remarks>
    [SkippableFact]
    public void OnOff_ManyCounts_Agrees() => Each("on_off", 4, v => Near(v[3], OnOff.Exact((int)v[0], (int)v[1], v[2]).Chance, 1e-11));

    /// <remarks>The script's grid has steps of 0.002, and the last accepted point lies inside.</remarks>
    [SkippableFact]
    public void FeldmanCousins_SortedConstruction_Agrees() => Each("unified", 5, v =>
    {
        Interval found = FeldmanCousins.Of((int)v[0], v[1], v[2], UpperLimitRule.Plain);
        Assert.InRange(v[3] - found.Low, -1e-9, 0.002001);
        Assert.InRange(found.High - v[4], -1e-9, 0.002001);
    });

    /// <remarks>Normal equations square the condition of the matrix, which is some hundred for the square one.</remarks>
    [SkippableFact]
    public void NonNegativeQuadratic_RandomProblems_Agrees()
    {
        foreach (JsonElement problem in Values.Value.RootElement.GetProperty("nonnegative").EnumerateArray())
        {
            double[][] a = [.. problem.GetProperty("a").EnumerateArray().Select(Numbers)];
            double[] b = Numbers(problem.GetProperty("b")), x = Numbers(problem.GetProperty("x"));
            int n = x.Length;
            double[] h = [.. from i in Enumerable.Range(0, n) from j in Enumerable.Range(0, n) select a.Sum(row => row[i] * row[j])];
            var solver = new NonNegativeQuadratic(n, n);
            Assert.True(solver.Solve(h, [.. Enumerable.Range(0, n).Select(j => a.Select((row, i) => row[j] * b[i]).Sum())]));
            Assert.Contains(0, x);
            for (int k = 0; k < n; k++) Assert.Equal(x[k], solver.X[k], 1e-10);
        }
    }

    /// <remarks>The script's simplex finds a minimum to the root of the rounding of its deviance: 1e-5 of an error. Its derivatives are differences.</remarks>
    [SkippableFact]
    public void PoissonFit_DataOfTheScript_Agrees()
    {
        foreach (JsonElement fit in Values.Value.RootElement.GetProperty("poisson_fits").EnumerateArray())
        {
            double[] x = Numbers(fit.GetProperty("x")), parameters = Numbers(fit.GetProperty("parameters")), errors = Numbers(fit.GetProperty("errors"));
            MeanFunction model = fit.GetProperty("name").GetString() == "gaussian" ? Models.Gaussian(x) : Models.Decay(x);
            PoissonFit found = PoissonFit.Find(model, Numbers(fit.GetProperty("counts")), Numbers(fit.GetProperty("start")), [0, 0, 0.1], [1e4, 1e3, 1e3]);
            Assert.True(found.Converged);
            Assert.Equal(fit.GetProperty("deviance").GetDouble(), found.Deviance, 1e-8);
            for (int k = 0; k < 3; k++)
            {
                Assert.Equal(parameters[k], found.Parameters[k], 1e-5 * errors[k]);
                Near(errors[k], Math.Sqrt(found.Covariance![k * 4]), 1e-6);
            }
        }
    }

    static void Each(string list, int width, Action<double[]> check)
    {
        double[][] rows = [.. Values.Value.RootElement.GetProperty(list).EnumerateArray().Select(Numbers)];
        Assert.NotEmpty(rows);
        Assert.All(rows, row => Assert.Equal(width, row.Length));
        Assert.All(rows, check);
    }

    static double[] Numbers(JsonElement list) => [.. list.EnumerateArray().Select(e => e.GetDouble())];

    static void Near(double expected, double found, double relative) => Assert.Equal(expected, found, relative * Math.Abs(expected));
}
