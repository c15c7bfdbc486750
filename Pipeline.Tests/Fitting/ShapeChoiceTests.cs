using Pipeline.Fitting;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

/// <summary>Which family is taken, and what is said of one that should not be.</summary>
public class ShapeChoiceTests
{
    static double[] Sum(double[] a, double[] b) => [.. a.Zip(b, (x, y) => x + y)];

    static FittedSpectrum Fit(string shape, double[] molecules, int seed) => new ShapeEstimator(shape, 3).Fit(ShapeRuns.Drawn(molecules, seed), ShapeRuns.Response);

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    public void Fit_BestOfOneBeam_TakesSupersonic(int seed)
    {
        FittedSpectrum fit = Fit("best", ShapeRuns.Beam(100, 140, 30), seed);
        Assert.Equal("supersonic", fit.Choices.Single(c => c.Chosen).Family);
        Assert.Equal(ShapeFamilies.Names, fit.Choices.Select(c => c.Family));
        Assert.Null(fit.Doubt);
        Assert.Contains("not the choice", fit.Description, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    public void Fit_BestOfTwoBeams_TakesTwoBeamsWithTheSlowerFirst(int seed)
    {
        FittedSpectrum fit = Fit("best", Sum(ShapeRuns.Beam(30, 70, 15), ShapeRuns.Beam(100, 150, 25)), seed);
        Assert.Equal("two-beams", fit.Choices.Single(c => c.Chosen).Family);
        Assert.Null(fit.Doubt);
        Assert.Equal(["molecules (slower)", "u (slower)", "alpha (slower)", "molecules (faster)", "u (faster)", "alpha (faster)"], fit.Parameters.Select(p => p.Name));
        AssertNear(70, fit.Parameters[1]);
        AssertNear(150, fit.Parameters[4]);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    public void Fit_BestOfEffusiveBeam_TakesEffusive(int seed)
    {
        FittedSpectrum fit = Fit("best", ShapeRuns.Beam(100, 0, 110), seed);
        Assert.Equal("effusive", fit.Choices.Single(c => c.Chosen).Family);
        AssertNear(110, fit.Parameters[1]);
    }

    [Theory]
    [InlineData("effusive", "an effusive beam does not describe")]
    [InlineData("supersonic", "one supersonic beam does not describe")]
    public void Fit_WrongFamily_IsDoubted(string shape, string doubt) =>
        Assert.Contains(doubt, Fit(shape, Sum(ShapeRuns.Beam(100, 70, 15), ShapeRuns.Beam(100, 150, 25)), 4).Doubt, StringComparison.Ordinal);

    /// <summary>Two beams where there is one: no family of its size may pass as a success.</summary>
    [Theory]
    [InlineData(5)]
    [InlineData(6)]
    public void Fit_TwoBeamsToOne_IsDoubted(int seed) => Assert.NotNull(Fit("two-beams", ShapeRuns.Beam(100, 140, 30), seed).Doubt);

    /// <summary>So slow that no velocity of the search is narrow enough: the width ends at its bound.</summary>
    [Fact]
    public void Fit_BeamNarrowerThanTheBound_IsDoubted()
    {
        double[] one = new double[ShapeRuns.Grid.Cells];
        one[30] = 30;
        Assert.NotNull(Fit("supersonic", one, 8).Doubt);
    }

    /// <summary>The spectrum of a spline and a beam agree where the data are the same beam.</summary>
    [Fact]
    public void Fit_SplineOfOneBeam_HasItsNumberAndMean()
    {
        double[] truth = ShapeRuns.Beam(100, 140, 30);
        FittedSpectrum fit = Fit("spline", truth, 9);
        SpectrumMoments expected = SpectrumMoments.Of(ShapeRuns.Grid, truth);
        Assert.Null(fit.Doubt);
        // about 2,800 counts: 2 % and 0.5 m/s, taken four times
        Assert.Equal(expected.Number, fit.Moments.Number, 0.08 * expected.Number);
        Assert.Equal(expected.Mean, fit.Moments.Mean, 2.0);
        Assert.InRange(fit.Choices.Single().Parameters, 3, 10);
    }

    static void AssertNear(double truth, ShapeParameter found) =>
        Assert.True(Math.Abs(truth - found.Value) <= 3 * Math.Max(found.High - found.Value, found.Value - found.Low), $"{found} should be near {truth}");
}
