namespace GainMargin.Numerics;

/// <summary>Assignment of least total cost between two sets of equal size.</summary>
/// <remarks>Shortest augmenting paths: H. W. Kuhn, Nav. Res. Logist. Q. 2 (1955) 83–97; R. Jonker, A. Volgenant, Computing 38 (1987) 325–340.</remarks>
internal static class Assignment
{
    /// <summary>Column assigned to each row of a square cost matrix.</summary>
    public static int[] Solve(double[,] cost)
    {
        int n = cost.GetLength(0);
        double[] rowPotential = new double[n + 1];
        double[] columnPotential = new double[n + 1];
        int[] rowOfColumn = new int[n + 1];
        int[] previous = new int[n + 1];
        for (int row = 1; row <= n; row++)
        {
            rowOfColumn[0] = row;
            int column = 0;
            double[] least = new double[n + 1];
            Array.Fill(least, double.PositiveInfinity);
            bool[] used = new bool[n + 1];
            do
            {
                used[column] = true;
                int current = rowOfColumn[column];
                double delta = double.PositiveInfinity;
                int next = 0;
                for (int j = 1; j <= n; j++)
                {
                    if (used[j])
                    {
                        continue;
                    }

                    double reduced = cost[current - 1, j - 1] - rowPotential[current] - columnPotential[j];
                    if (reduced < least[j])
                    {
                        least[j] = reduced;
                        previous[j] = column;
                    }

                    if (least[j] < delta)
                    {
                        delta = least[j];
                        next = j;
                    }
                }

                for (int j = 0; j <= n; j++)
                {
                    if (used[j])
                    {
                        rowPotential[rowOfColumn[j]] += delta;
                        columnPotential[j] -= delta;
                    }
                    else
                    {
                        least[j] -= delta;
                    }
                }

                column = next;
            }
            while (rowOfColumn[column] != 0);

            while (column != 0)
            {
                int before = previous[column];
                rowOfColumn[column] = rowOfColumn[before];
                column = before;
            }
        }

        int[] columnOfRow = new int[n];
        for (int j = 1; j <= n; j++)
        {
            columnOfRow[rowOfColumn[j] - 1] = j - 1;
        }

        return columnOfRow;
    }
}
