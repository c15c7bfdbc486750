using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

/// <summary>What every family of shapes must do.</summary>
public class ShapeFamilyTests
{
    static readonly ShapeFrame Frame = new(ShapeRuns.Grid, 3, [.. Enumerable.Repeat(true, ShapeRuns.Grid.Cells)]);

    public static TheoryData<string> Families => [.. ShapeFamilies.Names];

    /// <summary>A point of each family; that of the spline has no third differences, so that its prior does not pull.</summary>
    static double[] Truth(string family) => family switch
    {
        "effusive" => [800, 110],
        "supersonic" => [800, 140, 30],
        "two-beams" => [200, 70, 15, 600, 150, 25],
        "spline" => [.. Enumerable.Range(0, 10).Select(k => 2.5 - 0.8 * (k - 4.5) * (k - 4.5))],
        _ => throw new ArgumentOutOfRangeException(nameof(family), family, "no truth for this family"),
    };

    static IShapeFamily Make(string name) => ShapeFamilies.For(name, Frame).Single();

    [Theory]
    [MemberData(nameof(Families))]
    public void Fill_Slopes_MatchFiniteDifferences(string name)
    {
        IShapeFamily family = Make(name);
        double[] x = Truth(name);
        (_, double[][] slopes) = Fill(family, x);
        for (int k = 0; k < x.Length; k++)
        {
            double step = 1e-5 * Math.Max(1, Math.Abs(x[k]));
            double[] up = [.. x], down = [.. x];
            (up[k], down[k]) = (up[k] + step, down[k] - step);
            double[] above = Fill(family, up).Molecules, below = Fill(family, down).Molecules;
            double size = slopes[k].Max(Math.Abs);
            Assert.True(size > 0);
            for (int c = 0; c < above.Length; c++) Assert.Equal((above[c] - below[c]) / (2 * step), slopes[k][c], 1e-6 * size);
        }
    }

    [Theory]
    [MemberData(nameof(Families))]
    public void Scale_AnyFamily_MultipliesMolecules(string name)
    {
        IShapeFamily family = Make(name);
        double[] one = Fill(family, Truth(name)).Molecules, three = Fill(family, family.Scale(Truth(name), 3)).Molecules;
        for (int c = 0; c < one.Length; c++) Assert.Equal(3 * one[c], three[c], 1e-9 * one.Max());
    }

    /// <summary>Expected counts: the fit must find what they were made from, from its own starts.</summary>
    [Theory]
    [MemberData(nameof(Families))]
    public void Fit_ExpectedCounts_ReturnsTruth(string name)
    {
        double[] truth = Truth(name), molecules = Fill(Make(name), truth).Molecules;
        FittedSpectrum fit = new ShapeEstimator(name, 3).Fit(ShapeRuns.Expected(molecules), ShapeRuns.Response);
        Assert.Null(fit.Doubt);
        Assert.InRange(fit.Deviance, 0, 1e-6);
        for (int k = 0; k < truth.Length; k++)
        {
            Assert.Equal(truth[k], fit.Parameters[k].Value, 1e-4 * Math.Max(1, Math.Abs(truth[k])));
            Assert.InRange(truth[k], fit.Parameters[k].Low, fit.Parameters[k].High);
        }
        // repeated fits go another way to the same end
        Refitted again = fit.Refit(ShapeRuns.Expected([.. molecules.Select(m => 1.1 * m)]), ShapeRuns.Response);
        Assert.Equal(1.1 * molecules.Sum(), again.Molecules.Sum(), 1e-4 * molecules.Sum());
    }

    [Fact]
    public void Ordered_FasterBeamFirst_ChangesPlaces()
    {
        IShapeFamily family = Make("two-beams");
        Assert.Equal([200, 70, 15, 600, 150, 25, 0.5], family.Ordered([600, 150, 25, 200, 70, 15, 0.5]));
        Assert.Equal(Truth("two-beams"), family.Ordered(Truth("two-beams")));
    }

    /// <summary>Basis functions of a cubic spline add up to one everywhere, and a straight line of coefficients is a straight line.</summary>
    [Fact]
    public void Spline_StraightCoefficients_GiveAnExponential()
    {
        double slope = -0.02, knot = ShapeRuns.Grid.Step * ShapeRuns.Grid.Cells / 7;
        double[] molecules = Fill(Make("spline"), [.. Enumerable.Range(0, 10).Select(k => slope * (ShapeRuns.Grid.From + (k - 1) * knot))]).Molecules;
        for (int c = 0; c < molecules.Length; c++)
            Assert.Equal((Math.Exp(slope * ShapeRuns.Grid.Edge(c + 1)) - Math.Exp(slope * ShapeRuns.Grid.Edge(c))) / slope, molecules[c], 1e-8);
    }

    [Theory]
    [InlineData(2, "v^2 ")]
    [InlineData(3, "v^3 ")]
    public void Fit_Power_StandsInTheDescription(double power, string expected)
    {
        FittedSpectrum fit = new ShapeEstimator("supersonic", power).Fit(ShapeRuns.Expected(Fill(Make("supersonic"), Truth("supersonic")).Molecules), ShapeRuns.Response);
        Assert.Contains(expected, fit.Description, StringComparison.Ordinal);
        // a wrong power hides in drift and width: the spectrum stays
        Assert.Equal(SpectrumMoments.Of(ShapeRuns.Grid, Fill(Make("supersonic"), Truth("supersonic")).Molecules).Mean, fit.Moments.Mean, 0.5);
    }

    static (double[] Molecules, double[][] Slopes) Fill(IShapeFamily family, double[] x)
    {
        var molecules = new double[ShapeRuns.Grid.Cells];
        double[][] slopes = [.. x.Select(_ => new double[ShapeRuns.Grid.Cells])];
        family.Fill(x, molecules, slopes);
        return (molecules, slopes);
    }
}
