using Pipeline.Fitting;

namespace Pipeline.Tests.Fitting;

public class QuantityTests
{
    [Theory]
    [InlineData(double.NaN, 1, 0)]
    [InlineData(20, double.NaN, 0)]
    [InlineData(20, 1, double.NaN)]
    [InlineData(20, double.PositiveInfinity, 0)]
    public void Of_ValueOrErrorThatIsNoNumber_IsNotDetermined(double value, double statistical, double shift)
    {
        Quantity q = Quantity.Of(value, statistical, [new BudgetLine("x", shift)]);
        Assert.NotNull(q.NotDeterminedBecause);
        Assert.True(double.IsNaN(q.Value) && double.IsNaN(q.Total));
    }

    [Fact]
    public void Of_Numbers_AddsTheBudgetInQuadrature()
    {
        Quantity q = Quantity.Of(20, 12, [new BudgetLine("a", 3), new BudgetLine("b", -4)]);
        Assert.Null(q.NotDeterminedBecause);
        Assert.Equal((5.0, 13.0), (q.Systematic, q.Total));
    }
}
